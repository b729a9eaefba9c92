// Package symeig solves the symmetric eigenproblem: [Values] for eigenvalues alone, again
// and again without new memory, [Decompose] for eigenvalues and eigenvectors.
//
// A symmetric matrix A is reduced to tridiagonal form by reflections in panels (Householder
// 1958; Dongarra, Sorensen and Hammarling 1989); the eigenvalues alone come from the
// root-free QL iteration (Pal, Walker and Kahan, in Parlett 1980, section 8-15),
// eigenvalues with eigenvectors from dividing the tridiagonal matrix in two, down to small
// ones for the implicit QL iteration, and joining the halves (Cuppen 1981; Gu and Eisenstat
// 1995), after which the reflections are applied in blocks (Schreiber and Van Loan 1989).
// The method is backward stable: values and vectors are those of a matrix that differs from
// A by a small multiple of p·ε·‖A‖.
//
// The results have the same bits on any number of threads, and for one matrix on every
// machine whose Go compiler does not fuse multiplications and additions by itself.
package symeig
