export const waitingTexts = {};
