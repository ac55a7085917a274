// Loaded before the product where its memory is measured: says what it uses once its garbage is gone.
process.on('message', async () => {
  for (let time = 0; time < 3; time += 1) {
    globalThis.gc()
    await new Promise((resolve) => setTimeout(resolve, 50))
  }
  process.send(process.memoryUsage())
})
process.channel.unref()
