export const trackRecordTexts = {
  title: 'Track record',
  lead: 'Nothing stands here yet. It begins when a locked plan has met its sales.',
  holdsTitle: 'What it will hold',
  holds: {
    worth: [
      'The worth of each step',
      'Error of the naive guess, the model, the planner and the lead, side by side, with their ranges.',
    ],
    bias: ['Error and bias', 'By line, by weeks ahead, by person and by reason; gap weeks left out.'],
    ranges: ['Whether ranges held', 'How often sales fell inside the 80 and 95 % ranges that were promised.'],
    promotions: ['Ended promotions', 'Planned against realised uplift, and whether it paid.'],
    changed: ['Changed behaviour', 'Lines that no longer sell as the model expects; they also come up under Waiting.'],
  },
  kept: 'Every version, its fit and its locked weeks are kept from the first day, so that it can be scored as soon as this place opens.',
};
