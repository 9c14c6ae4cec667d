import { type FitSearch, runFitSearch } from './fit-search.ts';

self.onmessage = ({ data }: MessageEvent<FitSearch>) => self.postMessage(runFitSearch(data));
