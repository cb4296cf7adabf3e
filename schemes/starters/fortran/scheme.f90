! Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid.
module scheme
  use, intrinsic :: iso_c_binding
  implicit none
  private

  integer(c_int32_t), parameter :: ok = 0, not_offered = -32601

  ! The structures of gridassay_scheme.h, member by member.
  type, bind(c) :: state_type
    integer(c_int32_t) :: fields
    type(c_ptr) :: lengths ! int64 [fields]
    type(c_ptr) :: values  ! pointers to double [fields]
  end type

  type, bind(c) :: parameter_type
    type(c_ptr) :: name
    type(c_ptr) :: values ! double [count]
    integer(c_int32_t) :: count, is_vector
  end type

  type, bind(c) :: case_type
    type(c_ptr) :: equation, fields, parameters, coefficients, cells, lower, upper, edges, vertices, boundaries
    integer(c_int32_t) :: dimensions, field_count, parameter_count, coefficient_count
    integer(c_int32_t) :: source, steady_source, steady_boundary, steady_coefficient
  end type

  real(c_double) :: velocity = 0, spacing = 1

  character(len=*), parameter :: description = '{"contract": 1, "name": "lax-wendroff in Fortran", "version": "1.0", ' // &
    '"offers": [{"equation": "advection", "operations": ["advance"], "cells": {"minimum": 3}}]}' // c_null_char
  character(len=*), parameter :: refusal = 'this scheme takes `advection` in one dimension' // c_null_char
  character(kind=c_char), target, save :: text(len(description)), refusal_text(len(refusal))

contains

  function contract() bind(c, name='gridassay_contract') result(version)
    integer(c_int32_t) :: version
    version = 1
  end function

  function describe() bind(c, name='gridassay_describe') result(pointer)
    type(c_ptr) :: pointer
    call copy(description, text)
    pointer = c_loc(text)
  end function

  function message() bind(c, name='gridassay_message') result(pointer)
    type(c_ptr) :: pointer
    call copy(refusal, refusal_text)
    pointer = c_loc(refusal_text)
  end function

  function prepare(problem, harness) bind(c, name='gridassay_prepare') result(code)
    type(case_type), intent(in) :: problem
    type(c_ptr), value :: harness
    integer(c_int32_t) :: code
    type(parameter_type), pointer :: parameters(:)
    real(c_double), pointer :: values(:), lower(:), upper(:)
    integer(c_int64_t), pointer :: cells(:)
    integer :: k
    code = not_offered
    if (.not. c_associated(harness)) return
    if (problem%dimensions /= 1 .or. .not. is(problem%equation, 'advection')) return
    call c_f_pointer(problem%parameters, parameters, [problem%parameter_count])
    do k = 1, size(parameters)
      if (is(parameters(k)%name, 'velocity')) then
        call c_f_pointer(parameters(k)%values, values, [parameters(k)%count])
        velocity = values(1)
      end if
    end do
    call c_f_pointer(problem%cells, cells, [1])
    call c_f_pointer(problem%lower, lower, [1])
    call c_f_pointer(problem%upper, upper, [1])
    spacing = (upper(1) - lower(1)) / real(cells(1), c_double)
    code = ok
  end function

  function advance(time, step, steps, state, earlier, harness) bind(c, name='gridassay_advance') result(code)
    real(c_double), value :: time, step
    integer(c_int64_t), value :: steps
    type(state_type), intent(inout) :: state
    type(c_ptr), value :: earlier, harness
    integer(c_int32_t) :: code
    integer(c_int64_t), pointer :: lengths(:)
    type(c_ptr), pointer :: arrays(:)
    real(c_double), pointer :: u(:)
    real(c_double), allocatable :: flux(:)
    real(c_double) :: c
    integer(c_int64_t) :: k
    call c_f_pointer(state%lengths, lengths, [state%fields])
    call c_f_pointer(state%values, arrays, [state%fields])
    call c_f_pointer(arrays(1), u, [lengths(1)])
    c = velocity * step / spacing
    allocate (flux(size(u)))
    do k = 1, steps
      ! Through the lower face of each cell.
      flux = 0.5d0 * c * (u + cshift(u, -1)) - 0.5d0 * c**2 * (u - cshift(u, -1))
      u = u - (cshift(flux, 1) - flux)
    end do
    code = ok
    ! Arguments that this scheme has no use for.
    if (.false.) print *, time, c_associated(earlier), c_associated(harness)
  end function

  ! Whether a C text is `word`.
  logical function is(pointer, word)
    type(c_ptr), intent(in) :: pointer
    character(len=*), intent(in) :: word
    character(kind=c_char), pointer :: letters(:)
    integer :: k
    call c_f_pointer(pointer, letters, [len(word) + 1])
    is = .false.
    do k = 1, len(word)
      if (letters(k) /= word(k:k)) return
    end do
    is = letters(len(word) + 1) == c_null_char
  end function

  subroutine copy(from, to)
    character(len=*), intent(in) :: from
    character(kind=c_char), intent(out) :: to(:)
    integer :: k
    do k = 1, len(from)
      to(k) = from(k:k)
    end do
  end subroutine

end module
