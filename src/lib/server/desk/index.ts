export { now, sayWhen, workHref, type Now } from './now';
export { staffLines, type StaffLine } from './staff-lines';
export { studentLines, type StudentLine } from './student-lines';
