export const trackRecordTexts = {};
