export default {
  title: 'Case {number}',
  listTitle: 'Cases today',
  empty: 'No cases today',
  emptyHint: 'Cases appear here when they are planned for today.',
  starts: 'Starts',
  noRoom: 'No case in room {number} today',
}
