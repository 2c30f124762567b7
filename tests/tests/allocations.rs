//! The inner loop allocates nothing.

use std::alloc::{GlobalAlloc, Layout, System};
use std::cell::Cell;

use undulift_flight::{Equations, release};
use undulift_gait::Instant;
use undulift_tests::gliders::undulating;

thread_local! {
    static ALLOCATIONS: Cell<u64> = const { Cell::new(0) };
}

/// The system's allocator, counting on the thread that asks.
struct Counting;

// SAFETY: every call goes to the system's allocator unchanged.
unsafe impl GlobalAlloc for Counting {
    unsafe fn alloc(&self, layout: Layout) -> *mut u8 {
        ALLOCATIONS.with(|count| count.set(count.get() + 1));
        unsafe { System.alloc(layout) }
    }

    unsafe fn dealloc(&self, place: *mut u8, layout: Layout) {
        unsafe { System.dealloc(place, layout) }
    }
}

#[global_allocator]
static COUNTING: Counting = Counting;

#[test]
fn a_derivative_allocates_nothing() {
    let glider = undulating();
    let mut equations = Equations::new(&glider).unwrap();
    let state = release(&mut equations, &glider.launch, 0.0).unwrap();
    let before = ALLOCATIONS.with(Cell::get);
    let mut sum = 0.0;
    for step in 0..100 {
        sum += equations.rates(Instant::at(f64::from(step) * 0.01), &state)[9];
    }
    assert!(sum.is_finite());
    assert_eq!(ALLOCATIONS.with(Cell::get), before);
    // The counter counts.
    assert!(!std::hint::black_box(vec![0_u8; 10]).is_empty());
    assert_eq!(ALLOCATIONS.with(Cell::get), before + 1);
}
