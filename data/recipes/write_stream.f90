! write_stream.f90: a band grid from Fortran stream output, in atomic units, Pauli matrices for the spin.
! gfortran write_stream.f90 -o write_stream && ./write_stream DIRECTORY      (the directory must exist)
! Model: massive Dirac electrons on a square lattice (Qi, Wu and Zhang, Phys. Rev. B 74, 085308 (2006)),
! H = t [sin(kx a) sx + sin(ky a) sy + (u + cos(kx a) + cos(ky a)) sz] + t0 [cos(kx a) + cos(ky a)],
! spin = sigma / 2 (in hbar).
! Known result: with u = -1 the lower band has Chern number +1, so charge:xy = -1 e^2/h in the gap (level 0).
program write_stream
  use iso_fortran_env, only: real64
  implicit none
  integer, parameter :: n = 24
  real(real64), parameter :: hartree = 27.211386245981_real64, bohr = 0.529177210544_real64
  real(real64), parameter :: pi = acos(-1.0_real64), a = 3.0_real64 / bohr
  real(real64), parameter :: t = 1.0_real64 / hartree, t0 = 0.2_real64 / hartree, u = -1.0_real64, zero = 0.0_real64
  complex(real64), parameter :: i = (0.0_real64, 1.0_real64)
  complex(real64) :: c(2, 2), velocity(2, 2, 3), pauli(2, 2, 3), w   ! matrices are (bra, ket, direction)
  real(real64) :: x, y, e, dx, dy, dz, d, s
  integer :: i1, i2, fe, fv, fs, fm
  character(len=1000) :: out

  call get_command_argument(1, out)
  open (newunit=fe, file=trim(out)//'/energy.f64', access='stream', form='unformatted', status='replace')
  open (newunit=fv, file=trim(out)//'/velocity.c128', access='stream', form='unformatted', status='replace')
  open (newunit=fs, file=trim(out)//'/pauli.c128', access='stream', form='unformatted', status='replace')
  do i1 = 0, n - 1
    do i2 = 0, n - 1                                   ! i2 runs fastest
      x = 2 * pi * i1 / n                              ! kx a, ky a: the 2 pi belongs to b1, b2
      y = 2 * pi * i2 / n
      e = t0 * (cos(x) + cos(y))
      dx = t * sin(x); dy = t * sin(y); dz = t * (u + cos(x) + cos(y))
      d = sqrt(dx**2 + dy**2 + dz**2)
      w = cmplx(dx, dy, real64)
      s = sqrt(2 * d * (d + abs(dz)))                  ! the form that never divides by zero
      if (dz >= 0) then                                ! column 1: lower band, column 2: upper band
        c(:, 1) = [-conjg(w), cmplx(d + dz, 0, real64)] / s
        c(:, 2) = [cmplx(d + dz, 0, real64), w] / s
      else
        c(:, 1) = [cmplx(d - dz, 0, real64), -w] / s
        c(:, 2) = [conjg(w), cmplx(d - dz, 0, real64)] / s
      end if
      velocity(:, :, 1) = bands(field(-t0 * a * sin(x), t * a * cos(x), zero, -t * a * sin(x)))
      velocity(:, :, 2) = bands(field(-t0 * a * sin(y), zero, t * a * cos(y), -t * a * sin(y)))
      velocity(:, :, 3) = 0
      pauli(:, :, 1) = bands(field(zero, 1.0_real64, zero, zero))
      pauli(:, :, 2) = bands(field(zero, zero, 1.0_real64, zero))
      pauli(:, :, 3) = bands(field(zero, zero, zero, 1.0_real64))
      write (fe) e - d, e + d
      write (fv) velocity                              ! memory order: bra fastest, then ket, then direction
      write (fs) pauli
    end do
  end do
  close (fe); close (fv); close (fs)

  open (newunit=fm, file=trim(out)//'/bandgrid.json', status='replace')
  write (fm, '(a)') '{ "format": "bandgrid/1",'
  write (fm, '(a)') '  "title": "Massive Dirac electrons on a square lattice, from Fortran",'
  write (fm, '(3(a, es24.16))') '  "lattice": { "unit": "bohr", "periodic": 2, "vectors": [[', a, ', 0, 0], [0, ', a, &
    ', 0], [0, 0, ', 10 / bohr
  write (fm, '(2(a, i0), a)') '    ]] }, "mesh": { "divisions": [', n, ', ', n, ', 1], "offset": [0, 0, 0] },'
  write (fm, '(a)') '  "bands": 2, "electronsPerBand": 1,'
  write (fm, '(a)') '  "level": { "unit": "hartree", "fermi": 0.0, "electrons": 1 },'
  write (fm, '(a)') '  "arrays": {'
  write (fm, '(a)') '    "energy": { "files": "energy.f64", "type": "float64", "unit": "hartree",'
  write (fm, '(a)') '                "axes": ["k", "band"] },'
  write (fm, '(a)') '    "velocity": { "files": "velocity.c128", "type": "complex128", "unit": "hartree*bohr",'
  write (fm, '(a)') '                  "axes": ["k", "direction", "ket", "bra"] },'
  write (fm, '(a)') '    "moments": { "spin": { "files": "pauli.c128", "type": "complex128", "unit": "half-hbar",'
  write (fm, '(a)') '                            "axes": ["k", "direction", "ket", "bra"] } } } }'
  close (fm)

contains

  function field(e, x, y, z) result(o)                 ! e + x sx + y sy + z sz
    real(real64), intent(in) :: e, x, y, z
    complex(real64) :: o(2, 2)
    o = reshape([cmplx(e + z, 0, real64), x + i * y, x - i * y, &
                 cmplx(e - z, 0, real64)], [2, 2])
  end function

  function bands(o) result(m)                          ! m(bra, ket) = <bra| o |ket>
    complex(real64), intent(in) :: o(2, 2)
    complex(real64) :: m(2, 2)
    m = matmul(conjg(transpose(c)), matmul(o, c))
  end function

end program
