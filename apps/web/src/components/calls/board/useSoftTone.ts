import { ref, watch } from 'vue'

const KEY = 'bellpull.tone'
/** One soft sine, well below the noise of a room: A4, a third of a second. No alarm. */
const TONE = { hertz: 440, seconds: 0.35, gain: 0.06 }

const isOn = ref(remembered())
let context: AudioContext | null = null

function remembered(): boolean {
  try {
    return localStorage.getItem(KEY) === 'on'
  } catch {
    return false
  }
}

watch(isOn, (on) => {
  try {
    localStorage.setItem(KEY, on ? 'on' : 'off')
  } catch {
    // A browser that keeps nothing stays silent next time.
  }
})

/**
 * One soft tone for the person who has to act, and only once they have turned it on on this device. Browsers
 * let nothing sound before a touch; until then it stays silent and the screen says everything.
 */
export function useSoftTone() {
  function play(): void {
    if (!isOn.value || typeof AudioContext === 'undefined') return
    context ??= new AudioContext()
    if (context.state === 'suspended') void context.resume()
    const { hertz, seconds, gain } = TONE
    const start = context.currentTime
    const volume = context.createGain()
    volume.gain.setValueAtTime(0, start)
    volume.gain.linearRampToValueAtTime(gain, start + 0.08)
    volume.gain.linearRampToValueAtTime(0, start + seconds)
    const oscillator = context.createOscillator()
    oscillator.frequency.value = hertz
    oscillator.connect(volume).connect(context.destination)
    oscillator.start(start)
    oscillator.stop(start + seconds)
  }

  function toggle(): void {
    isOn.value = !isOn.value
    play()
  }

  return { isOn, play, toggle }
}
