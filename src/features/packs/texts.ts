export const packsTexts = {};
