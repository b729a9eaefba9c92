package reduce

import "axisfold/pca"

// clusterAt is the mean 1-|r| between two clusters up to which they are joined.
const clusterAt = 0.1

// clusters groups channels that tell one story, two or more each.
func clusters(r []float64, p int) [][]int { return pca.Cluster(r, p).Cut(clusterAt) }
