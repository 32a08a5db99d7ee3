! Writes the arrays of the Fortran band grid of this folder as stream output: no record marks.
! Run in fortran/: gfortran -o /tmp/make ../make.f90 && /tmp/make. Formulas as in make.py, indices from 0.
program make
  use iso_fortran_env, only: real64
  implicit none
  integer :: k, d, b, c, unit
  complex(real64) :: v(2, 2, 3, 6) ! (ket, bra, direction, k)
  complex(real64) :: w(6, 3, 2, 2) ! (k, direction, bra, ket)
  real(real64) :: e(2, 6)
  do k = 0, 5
    do b = 0, 1
      e(b + 1, k + 1) = k + 2*b - 0.3_real64
      do c = 0, 1
        do d = 0, 2
          v(c + 1, b + 1, d + 1, k + 1) = cmplx(100*(k + 1) + 10*d + min(b, c) + 0.1_real64*max(b, c), (b - c)*(k + d + 1), real64)
          w(k + 1, d + 1, b + 1, c + 1) = 2*v(c + 1, b + 1, d + 1, k + 1)/1000
        end do
      end do
    end do
  end do
  open (newunit=unit, file="energy.dat", access="stream", form="unformatted", status="replace")
  write (unit) e
  close (unit)
  open (newunit=unit, file="velocity.dat", access="stream", form="unformatted", status="replace")
  write (unit) v
  close (unit)
  open (newunit=unit, file="spin.dat", access="stream", form="unformatted", status="replace", convert="big_endian")
  write (unit) w
  close (unit)
end program make
