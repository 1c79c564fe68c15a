export const calendarTexts = {};
