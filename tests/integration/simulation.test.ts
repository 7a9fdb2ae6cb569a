/* The first half of the fixed seeds; `npm run simulate` runs others. */
import { testSeeds } from '../support/simulation/seeds-held';

testSeeds({ from: 1, seeds: 150 });
