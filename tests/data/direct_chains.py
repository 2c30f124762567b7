"""Chains by direct formulas, to check the library's numbers against.

Nothing here uses pin. Poses come from products of rotations, velocities from a complex step through
them, loads from Newton's and Euler's laws summed over the segments behind a joint.
"""

import numpy as np

GRAVITY_M_S2 = np.array([0.0, 0.0, -9.80665])
Y = np.array([0.0, 1.0, 0.0])
Z = np.array([0.0, 0.0, 1.0])


def has_yaw(joint):
    return joint in ("universal", "yaw")


def has_pitch(joint):
    return joint in ("universal", "pitch")


def rotation_z(angle):
    c, s = np.cos(angle), np.sin(angle)
    return np.array([[c, -s, 0], [s, c, 0], [0, 0, 1]])


def rotation_y(angle):
    c, s = np.cos(angle), np.sin(angle)
    return np.array([[c, 0, s], [0, 1, 0], [-s, 0, c]])


def rotation_of(wxyz):
    w, *xyz = wxyz
    x = cross_matrix(xyz)
    return np.eye(3) + 2 * w * x + 2 * x @ x


def cross_matrix(a):
    return np.array([[0, -a[2], a[1]], [a[2], 0, -a[0]], [-a[1], a[0], 0]])


def direct_body(chain, k):
    """Mass, centre in the segment's frame, inertia about that centre."""
    segment = chain["segments"][k]
    x, y, z = segment["length_m"], segment["width_m"], segment["thickness_m"]
    box = segment["structure_kg"] / 12 * np.diag([y * y + z * z, x * x + z * z, x * x + y * y])
    parts = [(segment["structure_kg"], np.array([-x / 2, 0, 0]), box)]
    for point in chain["attached"]:
        if point["segment_idx"] == k:
            parts.append((point["mass_kg"], np.array(point["at_m"]), np.zeros((3, 3))))
    mass = sum(m for m, _, _ in parts)
    centre = sum(m * at for m, at, _ in parts) / mass
    inertia = sum(
        own + m * ((at - centre) @ (at - centre) * np.eye(3) - np.outer(at - centre, at - centre))
        for m, at, own in parts
    )
    return mass, centre, inertia


def direct_poses(chain, yaw, pitch):
    """Rotations and centres in root axes; angles may be complex."""
    rotation, front = np.eye(3), np.zeros(3)
    rotations, centres = [], []
    for k, segment in enumerate(chain["segments"]):
        if k > 0:
            rotation = rotation @ rotation_z(yaw[k - 1]) @ rotation_y(-pitch[k - 1])
        rotations.append(rotation)
        centres.append(front + rotation @ direct_body(chain, k)[1])
        front = front - segment["length_m"] * rotation[:, 0]
    return np.array(rotations), np.array(centres)


def direct_shape(chain):
    """Velocities are derivatives of the poses by a complex step, exact to rounding."""
    step = 1e-30
    rotations, centres = direct_poses(chain, chain["yaw_rad"], chain["pitch_rad"])
    moved = direct_poses(
        chain,
        chain["yaw_rad"] + 1j * step * chain["yaw_rate_rad_s"],
        chain["pitch_rad"] + 1j * step * chain["pitch_rate_rad_s"],
    )
    spins = [(dr.imag / step) @ r.T for dr, r in zip(moved[0], rotations)]
    spins = np.array([[s[2, 1], s[0, 2], s[1, 0]] for s in spins])
    velocities = moved[1].imag / step
    bodies = [direct_body(chain, k) for k in range(len(centres))]
    masses = np.array([mass for mass, _, _ in bodies])
    centre, velocity = masses @ centres / masses.sum(), masses @ velocities / masses.sum()
    inertia, momentum = np.zeros((3, 3)), np.zeros(3)
    for (mass, _, own), r, p, w, u in zip(bodies, rotations, centres, spins, velocities):
        x = p - centre
        inertia += r @ own @ r.T + mass * (x @ x * np.eye(3) - np.outer(x, x))
        momentum += r @ own @ r.T @ w + mass * np.cross(x, u - velocity)
    return {
        "rotations": rotations.reshape(-1, 9),
        "centres_m": centres,
        "angular_velocities_rad_s": spins,
        "centre_velocities_m_s": velocities,
        "centre_of_mass_m": centre,
        "centre_of_mass_velocity_m_s": velocity,
        "centroidal_inertia_kg_m2": inertia.ravel(),
        "shape_momentum_kg_m2_s": momentum,
        "mass_kg": masses.sum(),
    }


def joint_axes(chain, case, k, rotation, spin):
    """Joint k's present axes in world: (name, unit vector, rate of that vector's own carrier, rate,
    acceleration), yaw first, pitch about the carried -y."""
    axes = []
    yaw_axis = rotation @ Z
    yaw_rate = chain["yaw_rate_rad_s"][k]
    if has_yaw(chain["joints"][k]):
        axes.append(("yaw", yaw_axis, spin, yaw_rate, case["yaw_acceleration_rad_s2"][k]))
    if has_pitch(chain["joints"][k]):
        pitch_axis = -(rotation @ rotation_z(chain["yaw_rad"][k]) @ Y)
        carrier = spin + yaw_axis * yaw_rate
        rate, acceleration = chain["pitch_rate_rad_s"][k], case["pitch_acceleration_rad_s2"][k]
        axes.append(("pitch", pitch_axis, carrier, rate, acceleration))
    return axes


def direct_motion(chain, case, loads):
    """World motion of every segment, head to tail, from the root acceleration under test.

    Returns a dictionary a segment, `joint` and `axes` being those of the joint ahead of it."""
    rotation = rotation_of(case["root_to_world_wxyz"])
    place, velocity = case["root_place_world_m"], case["root_velocity_world_m_s"]
    acceleration = loads["root_acceleration_world_m_s2"]
    spin = case["root_angular_velocity_world_rad_s"]
    spin_rate = loads["root_angular_acceleration_world_rad_s2"]
    rows = []
    for k, segment in enumerate(chain["segments"]):
        axes = []
        if k > 0:
            axes = joint_axes(chain, case, k - 1, rotation, spin)
            for _, axis, carrier, rate, rate_rate in axes:
                spin = spin + axis * rate
                spin_rate = spin_rate + axis * rate_rate + np.cross(carrier, axis) * rate
            yaw, pitch = chain["yaw_rad"][k - 1], chain["pitch_rad"][k - 1]
            rotation = rotation @ rotation_z(yaw) @ rotation_y(-pitch)
        mass, centre, own = direct_body(chain, k)
        arm, inertia = rotation @ centre, rotation @ own @ rotation.T
        turning = lambda r: np.cross(spin_rate, r) + np.cross(spin, np.cross(spin, r))  # noqa: E731
        rows.append(
            {
                "joint": place,
                "axes": axes,
                "centre": place + arm,
                "velocity": velocity + np.cross(spin, arm),
                "spin": spin,
                "needed_force": mass * (acceleration + turning(arm)),
                "weight": mass * GRAVITY_M_S2,
                "needed_moment": inertia @ spin_rate + np.cross(spin, inertia @ spin),
            }
        )
        back = -segment["length_m"] * rotation[:, 0]
        place, velocity = place + back, velocity + np.cross(spin, back)
        acceleration = acceleration + turning(back)
    return rows


def load_deviations(chain, case, loads):
    """How far the loads are from Newton's and Euler's laws, as fractions of the largest terms.

    - root: force and moment left over for the whole chain
    - torque: against the moment that the segments behind a joint need, along its axis
    - power: servos and loads against the rate of kinetic energy and work against gravity
    """
    rows = direct_motion(chain, case, loads)
    force_scale = max(np.linalg.norm(row["needed_force"]) for row in rows)
    length = sum(segment["length_m"] for segment in chain["segments"])
    force, moment_about_root = np.zeros(3), np.zeros(3)
    torque_gap, torque_scale, power, power_scale = 0.0, 0.0, 0.0, 0.0
    for k in reversed(range(len(rows))):
        row = rows[k]
        load_n, load_nm = case["force_at_centre_world_n"][k], case["moment_world_nm"][k]
        missing_n = row["needed_force"] - row["weight"] - load_n
        missing_nm = row["needed_moment"] - load_nm
        force = force + missing_n
        centre_from_root = row["centre"] - rows[0]["joint"]
        moment_about_root = moment_about_root + missing_nm + np.cross(centre_from_root, missing_n)
        joint_from_root = row["joint"] - rows[0]["joint"]
        moment = moment_about_root - np.cross(joint_from_root, force)
        for name, axis, _, rate, _ in row["axes"]:
            torque = loads[f"{name}_torque_nm"][k - 1]
            torque_gap = max(torque_gap, abs(torque - axis @ moment))
            torque_scale = max(torque_scale, abs(torque), np.linalg.norm(moment))
            power += torque * rate
        spent = row["velocity"] @ missing_n + row["spin"] @ missing_nm
        power -= spent
        power_scale += abs(spent)
    return {
        "force_left_at_root": np.abs(force).max() / force_scale,
        "moment_left_at_root": np.abs(moment_about_root).max() / (force_scale * length),
        "joint_torque": torque_gap / torque_scale,
        "power": abs(power) / power_scale,
    }


def shape_deviations(chain, shape):
    """Differences from the direct formulas, as fractions of the largest number of that key."""
    direct = direct_shape(chain)
    gaps = {}
    for key, value in shape.items():
        ours = np.asarray(direct[key])
        scale = np.abs(ours).max()
        gaps[key] = np.abs(np.asarray(value) - ours).max() / scale
    return gaps
