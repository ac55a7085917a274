export default {
  title: 'Room {number}',
}
