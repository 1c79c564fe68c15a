export { TrackRecordPage as Component } from '../../features/track-record/components/TrackRecordPage.tsx';
