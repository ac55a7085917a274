import caseArea from './case'
import common from './common'
import dispatch from './dispatch'
import fetchArea from './fetch'
import problem from './problem'
import room from './room'
import signIn from './signIn'
import verify from './verify'

/** English. Split by area, so that a screen's words stand together. */
export default { common, signIn, problem, room, dispatch, fetch: fetchArea, verify, case: caseArea }
