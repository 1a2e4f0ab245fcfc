// Package house holds no code: its tests keep the floors of the project apart.
// DEVELOPERS.md draws the floors; the tests read the imports of every package
// and fail when one reaches sideways or up.
package house
