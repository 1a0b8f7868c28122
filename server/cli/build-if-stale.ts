import {build} from './build.ts';
import {isBuildStale} from './build-stamp.ts';

if (isBuildStale()) await build();
