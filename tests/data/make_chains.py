"""Random chains: shape, velocities, centroidal quantities, joint loads.

Writes `chains.json` and `chain_loads.json` beside this script. All expected numbers come from pin
(made with 4.1.0), a general-purpose rigid-body library, with numpy (2.4.6) for a six by six
solve. Every number is then checked against `direct_chains.py`, which uses no pin, to 1e-12 of the
largest number of its kind.

Segment frame: x along the segment toward the head, y left, z out of the back, origin at the middle
of the front end. Joint i carries segment i + 1: R_{i+1} = R_i Rz(yaw_i) Ry(-pitch_i). Root axes are
those of segment 1. SI units and radians.
"""

import pathlib
import sys

import numpy as np
import pinocchio as pin

sys.dont_write_bytecode = True
import compact_json  # noqa: E402
from direct_chains import (  # noqa: E402
    GRAVITY_M_S2,
    has_pitch,
    has_yaw,
    load_deviations,
    shape_deviations,
)

HERE = pathlib.Path(__file__).parent
SEED = 20_140
TOLERANCE = 1e-12
N_SEGMENTS = [2, 2, 3, 3, 4, 5, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 16, 18, 20, 24, 28, 32, 36, 40]
PATTERNS = [
    ["universal"],
    ["yaw", "pitch"],
    "random",
    ["pitch", "yaw"],
    "random",
    ["universal"],
    ["yaw"],
    "random",
    ["pitch"],
]


# ---------------------------------------------------------------- random inputs


def uniform(rng, low, high, shape=None):
    """Six decimals, so that inputs are short to read."""
    return np.round(rng.uniform(low, high, shape), 6)


def random_joints(rng, pattern, n_joints):
    if pattern != "random":
        return [pattern[k % len(pattern)] for k in range(n_joints)]
    while True:
        joints = [str(j) for j in rng.choice(["universal", "yaw", "pitch", "fixed"], n_joints)]
        if any(joint != "fixed" for joint in joints):
            return joints


def per_axis(rng, joints, yaw_limit, pitch_limit):
    """One number a joint for yaw and for pitch, 0 where the axis is missing."""
    yaw = uniform(rng, -yaw_limit, yaw_limit, len(joints)) * [has_yaw(j) for j in joints]
    pitch = uniform(rng, -pitch_limit, pitch_limit, len(joints)) * [has_pitch(j) for j in joints]
    return yaw, pitch


def random_segment(rng):
    return {
        "length_m": uniform(rng, 0.03, 0.2),
        "width_m": uniform(rng, 0.02, 0.15),
        "thickness_m": uniform(rng, 0.004, 0.05),
        "structure_kg": uniform(rng, 0.005, 0.1),
    }


def random_point_mass(rng, segments):
    k = rng.integers(len(segments))
    length_m = segments[k]["length_m"]
    along_m = uniform(rng, -1.2 * length_m, 0.2 * length_m)
    across_m = uniform(rng, -0.1, 0.1, 2)
    return {
        "segment_idx": k,
        "at_m": [along_m, *across_m],
        "mass_kg": uniform(rng, 0.001, 0.08),
    }


def random_chain(rng, idx):
    n_segments = N_SEGMENTS[idx]
    joints = random_joints(rng, PATTERNS[idx % len(PATTERNS)], n_segments - 1)
    segments = [random_segment(rng) for _ in range(n_segments)]
    attached = [random_point_mass(rng, segments) for _ in range(rng.integers(6))]
    yaw_rad, pitch_rad = per_axis(rng, joints, 1.4, 0.9)
    yaw_rate_rad_s, pitch_rate_rad_s = per_axis(rng, joints, 9.0, 6.0)
    return {
        "segments": segments,
        "joints": joints,
        "attached": attached,
        "yaw_rad": yaw_rad,
        "pitch_rad": pitch_rad,
        "yaw_rate_rad_s": yaw_rate_rad_s,
        "pitch_rate_rad_s": pitch_rate_rad_s,
    }


def random_load_case(rng, chain):
    n_segments = len(chain["segments"])
    quaternion = rng.normal(size=4)
    yaw_rad_s2, pitch_rad_s2 = per_axis(rng, chain["joints"], 80.0, 50.0)
    return {
        "root_place_world_m": uniform(rng, -5.0, 5.0, 3),
        "root_to_world_wxyz": quaternion / np.linalg.norm(quaternion),
        "root_velocity_world_m_s": uniform(rng, -8.0, 8.0, 3),
        "root_angular_velocity_world_rad_s": uniform(rng, -6.0, 6.0, 3),
        "yaw_acceleration_rad_s2": yaw_rad_s2,
        "pitch_acceleration_rad_s2": pitch_rad_s2,
        "force_at_centre_world_n": uniform(rng, -2.0, 2.0, (n_segments, 3)),
        "moment_world_nm": uniform(rng, -0.1, 0.1, (n_segments, 3)),
    }


# ---------------------------------------------------------------- expected, by pin


def segment_inertia(chain, k):
    """A solid box and its point masses, added by the library's own rule, in the segment's frame."""
    segment = chain["segments"][k]
    length_m = segment["length_m"]
    box = pin.Inertia.FromBox(
        segment["structure_kg"], length_m, segment["width_m"], segment["thickness_m"]
    )
    inertia = pin.SE3(np.eye(3), np.array([-length_m / 2, 0.0, 0.0])).act(box)
    for point in chain["attached"]:
        if point["segment_idx"] == k:
            inertia += pin.Inertia(point["mass_kg"], np.array(point["at_m"]), np.zeros((3, 3)))
    return inertia


class Model:
    """A pin model: free-flyer, then RZ before RY where a joint has both."""

    def __init__(self, chain):
        self.pin = pin.Model()
        self.pin.gravity.linear = GRAVITY_M_S2
        self.chain = chain
        self.axes = []  # ("yaw" or "pitch", joint index) in the order of the velocity vector
        self.frames = []  # one frame a segment: its axes, at its centre of mass
        parent = self.pin.addJoint(0, pin.JointModelFreeFlyer(), pin.SE3.Identity(), "root")
        placement = pin.SE3.Identity()
        for k, segment in enumerate(chain["segments"]):
            if k > 0:
                parent, placement = self.add_joint(parent, placement, k - 1)
            self.add_segment(parent, placement, k)
            rear = pin.SE3(np.eye(3), np.array([-segment["length_m"], 0.0, 0.0]))
            placement = placement * rear
        self.data = self.pin.createData()

    def add_joint(self, parent, placement, k):
        """Returns the joint and the place in it that the segment behind starts from."""
        joint = self.chain["joints"][k]
        for present, axis, kind in [
            (has_yaw(joint), "yaw", pin.JointModelRZ()),
            (has_pitch(joint), "pitch", pin.JointModelRY()),
        ]:
            if present:
                parent = self.pin.addJoint(parent, kind, placement, f"{axis}{k}")
                placement = pin.SE3.Identity()
                self.axes.append((axis, k))
        return parent, placement

    def add_segment(self, parent, placement, k):
        inertia = segment_inertia(self.chain, k)
        self.pin.appendBodyToJoint(parent, inertia, placement)
        at_centre = placement * pin.SE3(np.eye(3), inertia.lever)
        frame = pin.Frame(f"segment{k}", parent, at_centre, pin.FrameType.OP_FRAME)
        self.frames.append(self.pin.addFrame(frame))

    def along_axes(self, yaw, pitch):
        """Pitch is a rotation of -pitch about +y."""
        return np.array([yaw[k] if axis == "yaw" else -pitch[k] for axis, k in self.axes])

    def angles(self):
        return self.along_axes(self.chain["yaw_rad"], self.chain["pitch_rad"])

    def rates(self):
        return self.along_axes(self.chain["yaw_rate_rad_s"], self.chain["pitch_rate_rad_s"])


def expected_shape(chain):
    """Everything with segment 1 held still at the origin."""
    model = Model(chain)
    data = model.data
    q = np.concatenate([[0, 0, 0, 0, 0, 0, 1], model.angles()])
    v = np.concatenate([np.zeros(6), model.rates()])
    pin.forwardKinematics(model.pin, data, q, v)
    pin.updateFramePlacements(model.pin, data)
    placements = [data.oMf[frame].copy() for frame in model.frames]
    velocities = [
        pin.getFrameVelocity(model.pin, data, frame, pin.ReferenceFrame.LOCAL_WORLD_ALIGNED)
        for frame in model.frames
    ]
    pin.ccrba(model.pin, data, q, v)
    mass_kg = pin.computeTotalMass(model.pin)
    return {
        "rotations": [placement.rotation.ravel() for placement in placements],
        "centres_m": [placement.translation for placement in placements],
        "angular_velocities_rad_s": [velocity.angular for velocity in velocities],
        "centre_velocities_m_s": [velocity.linear for velocity in velocities],
        "centre_of_mass_m": data.com[0].copy(),
        "centre_of_mass_velocity_m_s": data.hg.linear / mass_kg,
        "centroidal_inertia_kg_m2": data.Ig.inertia.ravel(),
        "shape_momentum_kg_m2_s": data.hg.angular.copy(),
        "mass_kg": mass_kg,
    }


def pin_state(model, case):
    """Place and velocity as pin wants them: quaternion scalar last, root velocity in root axes."""
    w, *xyz = case["root_to_world_wxyz"]
    root_to_world = pin.Quaternion(w, *xyz).toRotationMatrix()
    q = np.concatenate([case["root_place_world_m"], xyz, [w], model.angles()])
    v = np.concatenate(
        [
            root_to_world.T @ case["root_velocity_world_m_s"],
            root_to_world.T @ case["root_angular_velocity_world_rad_s"],
            model.rates(),
        ]
    )
    return root_to_world, q, v


def external_forces(model, case, q):
    """World loads at the segments' centres, gathered on pin's joints in the joints' axes."""
    pin.framesForwardKinematics(model.pin, model.data, q)
    on_joints = [pin.Force.Zero() for _ in range(model.pin.njoints)]
    loads = zip(model.frames, case["force_at_centre_world_n"], case["moment_world_nm"])
    for frame, force_n, moment_nm in loads:
        world_to_frame = model.data.oMf[frame].rotation.T
        load = pin.Force(world_to_frame @ force_n, world_to_frame @ moment_nm)
        joint = model.pin.frames[frame].parentJoint
        on_joints[joint] += model.pin.frames[frame].placement.act(load)
    return on_joints


def expected_loads(chain, case):
    """Root acceleration that leaves no wrench at the root, then the torques by inverse dynamics."""
    model = Model(chain)
    root_to_world, q, v = pin_state(model, case)
    on_joints = external_forces(model, case, q)
    known = model.along_axes(case["yaw_acceleration_rad_s2"], case["pitch_acceleration_rad_s2"])
    at_rest = np.concatenate([np.zeros(6), known])
    wrench = pin.rnea(model.pin, model.data, q, v, at_rest, on_joints)[:6].copy()
    mass_matrix = np.triu(pin.crba(model.pin, model.data, q)[:6, :6])
    mass_matrix = mass_matrix + np.triu(mass_matrix, 1).T
    root = np.linalg.solve(mass_matrix, -wrench)
    efforts = pin.rnea(model.pin, model.data, q, v, np.concatenate([root, known]), on_joints)
    assert np.abs(efforts[:6]).max() <= TOLERANCE * np.abs(wrench).max()
    torques = {axis: [None] * len(chain["joints"]) for axis in ("yaw", "pitch")}
    for (axis, k), effort in zip(model.axes, efforts[6:]):
        torques[axis][k] = effort if axis == "yaw" else -effort
    # pin's free-flyer has the spatial acceleration; the classical one adds angular x linear.
    classical = root[:3] + np.cross(v[3:6], v[:3])
    return {
        "root_acceleration_world_m_s2": root_to_world @ classical,
        "root_angular_acceleration_world_rad_s2": root_to_world @ root[3:],
        "yaw_torque_nm": torques["yaw"],
        "pitch_torque_nm": torques["pitch"],
    }


# ---------------------------------------------------------------- files

CHAIN_KEYS = {
    "segments": "solid boxes, from the head; structure_kg leaves attached masses out",
    "joints": "joint k joins segments k and k + 1 counted from 0",
    "attached": "point masses; segment_idx from 0, at_m in that segment's frame",
    "yaw_rad, pitch_rad and their rates": "one a joint, 0 where the axis is missing",
    "rotations": "row-major, segment axes to root axes",
    "centres_m": "segment centres of mass, attached masses included, root frame",
    "angular_velocities_rad_s": "of each segment, segment 1 held still, root axes",
    "centre_velocities_m_s": "of each segment's centre of mass, segment 1 held still, root axes",
    "centre_of_mass_m": "of the whole chain, root frame",
    "centre_of_mass_velocity_m_s": "of the whole chain, segment 1 held still, root axes",
    "centroidal_inertia_kg_m2": "row-major, about the whole chain's centre of mass, root axes",
    "shape_momentum_kg_m2_s": "angular momentum about the centre of mass, segment 1 held still",
    "mass_kg": "whole chain, attached masses included",
}
LOAD_KEYS = {
    "chains": "by index the chains of chains.json, with the joint angles and rates given there",
    "root_place_world_m": "front end of segment 1, world axes",
    "root_to_world_wxyz": "scalar first, takes segment-1 vectors to world",
    "root_velocity_world_m_s": "of segment 1's front end, world axes",
    "root_angular_velocity_world_rad_s": "of segment 1, world axes",
    "yaw_acceleration_rad_s2, pitch_acceleration_rad_s2": "prescribed, 0 where the axis is missing",
    "force_at_centre_world_n": "on each segment at its centre of mass, world axes",
    "moment_world_nm": "couple on each segment beside that force, world axes",
    "root_acceleration_world_m_s2": "expected: d/dt of root_velocity_world_m_s, gravity's part"
    " included, such that no wrench acts at the root",
    "root_angular_acceleration_world_rad_s2": "expected: d/dt of root_angular_velocity_world_rad_s",
    "yaw_torque_nm, pitch_torque_nm": "expected: on the segments behind by the segment ahead,"
    " positive along the positive joint angle, null where the axis is missing",
}


def tally(worst, gaps):
    for key, gap in gaps.items():
        worst[key] = max(worst.get(key, 0.0), float(gap))


def main():
    rng = np.random.default_rng(SEED)
    chains = [random_chain(rng, idx) for idx in range(len(N_SEGMENTS))]
    cases = [random_load_case(rng, chain) for chain in chains]
    worst, full_chains, full_cases = {}, [], []
    for chain, case in zip(chains, cases):
        shape, loads = expected_shape(chain), expected_loads(chain, case)
        tally(worst, shape_deviations(chain, shape))
        tally(worst, load_deviations(chain, case, loads))
        full_chains.append(chain | shape)
        full_cases.append(case | loads)
    for key, gap in worst.items():
        print(f"  {key}: {gap:.1e}")
        assert gap < TOLERANCE, key
    made_by = f"make_chains.py, pin {pin.__version__}, numpy {np.__version__}, seed {SEED}"
    head = {"made_by": made_by, "keys": CHAIN_KEYS}
    compact_json.write(HERE / "chains.json", head | {"chains": full_chains})
    head = {"made_by": made_by, "keys": LOAD_KEYS, "gravity_world_m_s2": GRAVITY_M_S2}
    compact_json.write(HERE / "chain_loads.json", head | {"chains": full_cases})


if __name__ == "__main__":
    main()
