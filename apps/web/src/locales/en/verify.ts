export default {
  title: 'Verify before opening',
}
