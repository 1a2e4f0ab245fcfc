// Package dense is the linear algebra that the statistical packages call when
// speed decides: matrix products behind gonum's BLAS interface.
//
// Nothing here is registered for the whole process. A package asks for
// Default and calls its level-3 routines with row-major slices; importing
// kindwell's packages therefore changes nothing for another program's gonum.
//
// Each element of a product is summed in one fixed order, whatever the number
// of threads.
package dense
