export { CalendarPage as Component } from '../../features/calendar/components/CalendarPage.tsx';
