use std::ops::{Add, Sub};

use nalgebra::Vector3;
use wide::{f64x2, f64x4};

use crate::Number;

/// Three numbers in space.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Triple<T> {
    /// Along x.
    pub x: T,
    /// Along y.
    pub y: T,
    /// Along z.
    pub z: T,
}

impl<T: Number> Triple<T> {
    /// From its parts.
    #[inline(always)]
    pub fn new(x: T, y: T, z: T) -> Self {
        Self { x, y, z }
    }

    /// 0 in every direction.
    #[inline(always)]
    pub fn zero() -> Self {
        Self::new(T::splat(0.0), T::splat(0.0), T::splat(0.0))
    }

    /// Sum of products.
    #[inline(always)]
    pub fn dot(self, other: Self) -> T {
        self.x * other.x + self.y * other.y + self.z * other.z
    }

    /// Right-handed.
    #[inline(always)]
    pub fn cross(self, other: Self) -> Self {
        Self::new(
            self.y * other.z - self.z * other.y,
            self.z * other.x - self.x * other.z,
            self.x * other.y - self.y * other.x,
        )
    }

    /// Each part times a factor.
    #[inline(always)]
    pub fn times(self, factor: T) -> Self {
        Self::new(self.x * factor, self.y * factor, self.z * factor)
    }
}

impl Triple<f64x2> {
    /// Two side by side.
    #[inline(always)]
    pub fn pair(of: [Triple<f64>; 2]) -> Self {
        let [a, b] = of;
        Self::new(f64x2::new([a.x, b.x]), f64x2::new([a.y, b.y]), f64x2::new([a.z, b.z]))
    }

    /// Takes one lane.
    #[inline(always)]
    pub fn lane(&self, lane: usize) -> Triple<f64> {
        let of = |two: &f64x2| two.as_array_ref()[lane];
        Triple { x: of(&self.x), y: of(&self.y), z: of(&self.z) }
    }
}

impl Triple<f64> {
    /// The same in every lane.
    #[inline(always)]
    pub fn in_lanes(self) -> Triple<f64x4> {
        Triple { x: f64x4::splat(self.x), y: f64x4::splat(self.y), z: f64x4::splat(self.z) }
    }
}

impl Triple<f64x4> {
    /// Sum over the lanes.
    #[inline(always)]
    pub fn over_lanes(self) -> Triple<f64> {
        Triple { x: self.x.reduce_add(), y: self.y.reduce_add(), z: self.z.reduce_add() }
    }

    /// Puts one lane.
    #[inline(always)]
    pub fn set_lane(&mut self, lane: usize, value: Triple<f64>) {
        self.x.as_array_mut()[lane] = value.x;
        self.y.as_array_mut()[lane] = value.y;
        self.z.as_array_mut()[lane] = value.z;
    }

    /// Takes one lane.
    #[inline(always)]
    pub fn lane(&self, lane: usize) -> Triple<f64> {
        Triple {
            x: self.x.as_array_ref()[lane],
            y: self.y.as_array_ref()[lane],
            z: self.z.as_array_ref()[lane],
        }
    }
}

impl<T: Number> Add for Triple<T> {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: Self) -> Self {
        Self::new(self.x + other.x, self.y + other.y, self.z + other.z)
    }
}

impl<T: Number> Sub for Triple<T> {
    type Output = Self;
    #[inline(always)]
    fn sub(self, other: Self) -> Self {
        Self::new(self.x - other.x, self.y - other.y, self.z - other.z)
    }
}

impl From<Vector3<f64>> for Triple<f64> {
    fn from(v: Vector3<f64>) -> Self {
        Self { x: v.x, y: v.y, z: v.z }
    }
}

impl From<Triple<f64>> for Vector3<f64> {
    fn from(t: Triple<f64>) -> Self {
        Vector3::new(t.x, t.y, t.z)
    }
}
