// Package ritz gives all eigenvalues and right eigenvectors of a small general
// complex matrix: the projected problems of Arnoldi's method and of a block of vectors.
//
// Source: Householder reduction to Hessenberg form and the shifted QR iteration with
// Givens rotations; Golub and Van Loan, Matrix Computations, 7.4 and 7.5.
package ritz
