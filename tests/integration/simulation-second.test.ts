/* The second half of the fixed seeds, in a file of its own so that both run side by side. */
import { testSeeds } from '../support/simulation/seeds-held';

testSeeds({ from: 151, seeds: 150 });
